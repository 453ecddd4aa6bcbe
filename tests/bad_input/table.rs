use gatemix::files::table::{Line, MOST_PROBLEMS, Table};

use crate::said;

fn refused(text: &str) -> Vec<String> {
    said(&Table::parse(text).unwrap_err())
}

fn numbers(table: &Table) -> Vec<Vec<Option<f64>>> {
    let row = |r| (0..table.columns.len()).map(|c| table.number(r, c).unwrap()).collect();
    (0..table.len()).map(row).collect()
}

#[test]
fn scenario_a_cast_as_a_logger_writes_it() {
    let text = "\u{feff}# taken: 2025-07-14T10:30\r\n#Pool : 60\r\n\r\n Depth_m , \"temperature_C\",note\r\n\
                0, 21.5 ,\"calm, clear\"\r\n  # lowered: slowly\r\n,,\r\n5,,\r\n";
    let table = Table::parse(text).unwrap();
    assert_eq!(
        (table.columns.as_slice(), table.header_line, table.delimiter),
        (["Depth_m", "temperature_C", "note"].map(String::from).as_slice(), 4, ',')
    );
    let meta: Vec<_> = table.meta().collect();
    let expected = [("taken", "2025-07-14T10:30", 1), ("pool", "60", 2), ("lowered", "slowly", 6)];
    assert_eq!(meta, expected.map(|(key, value, line)| (key.to_owned(), value, line)));
    assert_eq!(table.comments[2], Line { number: 6, text: "lowered: slowly".to_owned() });
    assert_eq!((table.len(), table.is_empty()), (2, false));
    assert_eq!((table.line(0), table.line(1), table.line(2)), (Some(5), Some(8), None));
    assert_eq!((table.column("depth_M"), table.column("oxygen_mg_l")), (Some(0), None));
    assert_eq!(
        (table.cell(0, 2), table.cell(1, 2), table.cell(2, 0), table.cell(0, 3)),
        (Some("calm, clear"), Some(""), None, None)
    );
    assert_eq!(
        (table.number(0, 1), table.number(1, 1), table.number(9, 9)),
        (Ok(Some(21.5)), Ok(None), Ok(None))
    );
    assert_eq!((table.skipped, table.notes), (vec![], vec![]));
}

#[test]
fn scenario_the_delimiter_is_read_from_the_header() {
    for delimiter in [',', ';', '\t', '|'] {
        let text = "depth_m,temperature_C\n1.5,20\n".replace(',', &delimiter.to_string());
        let table = Table::parse(&text).unwrap();
        assert_eq!((table.delimiter, numbers(&table)), (delimiter, vec![vec![Some(1.5), Some(20.0)]]));
    }
    let quoted = Table::parse("\"#\";\"Temp, °C (a, b, c)\"\n1;20\n").unwrap();
    assert_eq!(
        (quoted.delimiter, quoted.columns),
        (';', vec!["#".to_owned(), "Temp, °C (a, b, c)".to_owned()])
    );
    let single = Table::parse("depth_m\r1\r2\r").unwrap();
    assert_eq!((single.len(), single.line(1)), (2, Some(3)));
}

#[test]
fn scenario_a_decimal_comma_is_read_and_told() {
    let table = Table::parse("depth_m;temperature_C\n0,5;21,30\n-1,5;8\n").unwrap();
    assert_eq!(numbers(&table), [[Some(0.5), Some(21.3)], [Some(-1.5), Some(8.0)]]);
    assert_eq!(said(&table.notes), ["line 2: note: decimal commas were read as decimal points"]);
}

#[test]
fn scenario_a_comma_beside_decimal_points_is_not_guessed() {
    let table = Table::parse("temperature_C;conductivity_us_cm\n12.5;1,234\n").unwrap();
    let problem = table.number(0, 1).unwrap_err().to_string();
    let words = "conductivity_us_cm: \"1,234\" has a comma where line 2 writes a decimal point; \
                 write every number with a point and no thousands mark";
    assert_eq!(problem, format!("line 2: refused: {words}"));
    assert_eq!((table.number(0, 0), table.notes), (Ok(Some(12.5)), vec![]));
}

#[test]
fn scenario_cells_that_are_no_numbers_are_refused() {
    let table =
        Table::parse("depth_m;t\nNaN;-\ninf;NA\n1e999;n/a\n1.234,5;12,5,0\n1 2;0x10\n,5;5,\n-999;+2e1\n")
            .unwrap();
    let said = |row, column| table.number(row, column).unwrap_err().to_string();
    let cure = "leave the cell blank where nothing was measured";
    assert_eq!(said(0, 0), format!("line 2: refused: depth_m: \"NaN\" is not a finite number; {cure}"));
    assert_eq!(said(1, 0), format!("line 3: refused: depth_m: \"inf\" is not a finite number; {cure}"));
    assert_eq!(said(2, 0), format!("line 4: refused: depth_m: \"1e999\" is not a finite number; {cure}"));
    for (row, column, cell) in [
        (0, 1, "-"),
        (1, 1, "NA"),
        (2, 1, "n/a"),
        (3, 0, "1.234,5"),
        (3, 1, "12,5,0"),
        (4, 0, "1 2"),
        (4, 1, "0x10"),
        (5, 1, "5,"),
    ] {
        assert!(
            said(row, column).ends_with(&format!(": \"{cell}\" is not a number; {cure}")),
            "{}",
            said(row, column)
        );
    }
    assert_eq!(
        (table.number(5, 0), table.number(6, 0), table.number(6, 1)),
        (Ok(Some(0.5)), Ok(Some(-999.0)), Ok(Some(20.0)))
    );
}

#[test]
fn scenario_every_row_that_does_not_fit_is_told() {
    let text = "a,b,c\n1,2,3\n1,2\n# x\n1,2,3,4\n1,2,3,,\n1,\"2,3\n1,\"2,3,4\"\n";
    assert_eq!(
        refused(text),
        [
            "line 3: refused: 2 cells where the header names 3; \
             add the missing cells; leave one blank where nothing was measured",
            "line 5: refused: 4 cells where the header names 3; \
             take out the surplus; a decimal comma needs semicolons between the cells",
            "line 7: refused: a quote is opened and not closed on this line; close it or take it out",
            "line 8: refused: 2 cells where the header names 3; \
             add the missing cells; leave one blank where nothing was measured",
        ]
    );
    let said = refused("a;b\n1;2\n1;2;3\n");
    let words = "2 cells where the header names 2".replace("2 cells", "3 cells");
    assert_eq!(
        said,
        [format!(
            "line 3: refused: {words}; take out the surplus, or put a cell that holds the delimiter in quotes"
        )]
    );
}

#[test]
fn scenario_a_flood_of_bad_rows_is_counted() {
    let text = "a,b\n1,2\n".to_owned() + &"1\n".repeat(MOST_PROBLEMS + 7);
    let said = refused(&text);
    assert_eq!(said.len(), MOST_PROBLEMS + 1);
    assert_eq!(
        said[MOST_PROBLEMS],
        "refused: problems on further lines, not shown: 7; cure the ones above first"
    );
}

#[test]
fn scenario_a_file_without_header_is_refused() {
    let cure = "put a line above the data that names each column and its unit";
    assert_eq!(
        refused("# only\n\n# comments\n"),
        [format!("refused: there is no line but comments; {cure}")]
    );
    assert_eq!(refused(""), [format!("refused: there is no line but comments; {cure}")]);
    let number =
        |cell: &str| format!("refused: \"{cell}\" stands where the header should name the columns; {cure}");
    assert_eq!(refused("# x\n0.5,21.3\n1,20\n"), [format!("line 2: {}", number("0.5"))]);
    assert_eq!(refused("01.07.2025;21,3\n"), [format!("line 1: {}", number("21,3"))]);
    let preamble = "Exported by a logger\ndepth_m,temperature_C\n0,21\n\"1,2\n";
    assert_eq!(
        refused(preamble),
        [
            "line 1: refused: this line names 1 columns, yet no line below has as many cells (line 2 has 2); \
             make the header name every column, and put # before lines above it",
            "line 4: refused: a quote is opened and not closed on this line; close it or take it out",
        ]
    );
    assert_eq!(
        refused("\"depth_m,t\n1,2\n"),
        ["line 1: refused: a quote is opened and not closed on this line; close it or take it out"]
    );
}

#[test]
fn scenario_a_preamble_is_passed_over_where_the_header_can_be_told() {
    let text = "Serial: 10\" probe\nModel,\"X\n;;;\n# pool: 60\ndepth_m;temperature_C\n1;20\n";
    let is_header = |cells: &[String]| cells.iter().any(|cell| cell == "depth_m");
    let table = Table::parse_with(text, &is_header).unwrap();
    assert_eq!((table.header_line, table.line(0)), (5, Some(6)));
    let skipped: Vec<_> = table.skipped.iter().map(|line| (line.number, line.text.as_str())).collect();
    assert_eq!(skipped, [(1, "Serial: 10\" probe"), (2, "Model,\"X")]);
    assert_eq!(said(&table.notes), ["line 1: note: what stands above the header on line 5 was passed over"]);

    let never = Table::parse_with(text, &|_| false).unwrap_err();
    let words = "no line names the columns; name the columns with their units, such as depth_m, \
                 or map them under columns: in the site file";
    assert_eq!(said(&never), [format!("refused: {words}")]);
}

#[test]
fn scenario_a_column_named_twice_is_refused() {
    let said = refused("depth_m,Temp,,temp,DEPTH_M,,\n1,2,3,4,5,6\n");
    let problem = |name: &str| {
        format!("line 1: refused: two columns are named {name}; keep one of them or rename the other")
    };
    assert_eq!(said, [problem("temp"), problem("DEPTH_M")]);
}

#[test]
fn scenario_comments_that_a_spreadsheet_filled_up_are_still_comments() {
    let table =
        Table::parse("# taken: 2025-07-14,,\n\"# pool: 60, local\",,\n#\ndepth_m,t,u\n1,2,3\n").unwrap();
    let meta: Vec<_> = table.meta().collect();
    assert_eq!(meta, [("taken".to_owned(), "2025-07-14", 1), ("pool".to_owned(), "60, local", 2)]);
}

#[test]
fn scenario_a_line_without_end_is_refused() {
    let text = format!("a,b\n1,2\n{}\n3,4\n", ",".repeat(2 << 20));
    assert_eq!(
        refused(&text),
        [
            "line 3: refused: this line is longer than 1 MiB; check that this is a table with one row on a line"
        ]
    );
}
