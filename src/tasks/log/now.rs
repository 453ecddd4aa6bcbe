//! What is set now: by the log, else by the site file.

use crate::problem::Problem;
use crate::record::Decided;
use crate::tasks::Context;
use crate::tasks::words::Given;

impl Context {
    /// The decision whose gates stand on the date of the answer.
    pub fn standing(&self) -> Option<Decided<'_>> {
        self.log.log.standing(self.on)
    }

    /// What is set now, in numbers, and what to say of where that comes from.
    pub fn now_given(&self) -> (Given, Vec<Problem>) {
        let site = self.site();
        if let Some(given) = &self.set_before {
            return ((**given).clone(), Vec::new());
        }
        let Some(decided) = self.standing() else { return (Given::now(site), Vec::new()) };
        let (id, since) = (decided.id, decided.decision.from.with_timezone(&site.offset).date_naive());
        let (given, gone) = Given::logged(site, &decided.decision.chosen);
        let mut said =
            vec![Problem::note("now-logged", format!("set now: decision {id} of the log, since {since}"))];
        if let Some(until) = decided.decision.until.filter(|_| decided.is_overdue(self.on.date_naive())) {
            let words =
                format!("decision {id} was to be decided again by {until}: its gates are taken as still set");
            said.push(Problem::flag("overdue", words, "log what is set now"));
        }
        if !gone.is_empty() {
            let words = format!("decision {id} sets gates that the site no longer has: {}", gone.join(", "));
            said.push(Problem::flag("log-gates", words, "log what is set now"));
        }
        (given, said)
    }
}
