// checks.csv: one row a model check, class and image (docs/outputs.md), made from the records.
#ifndef STILLFIELD_REPORT_CHECK_TABLE_H_
#define STILLFIELD_REPORT_CHECK_TABLE_H_

#include "report/csv.h"
#include "report/record.h"

namespace stillfield {

CsvTable checks_table();
void add_checks(const ImageRecord& record, CsvTable& table);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_CHECK_TABLE_H_
