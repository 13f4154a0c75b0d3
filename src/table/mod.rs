//! Reading tables: delimited text, columns, missing values, exclusions. It knows no study.
