//! The notebook: document, cells, fields, graph, engine, diagnostics; `kinds` holds one file per cell kind.
