// checks.csv: one row a model check, class and image (docs/outputs.md), made from the records.
#ifndef STILLFIELD_REPORT_CHECK_TABLE_H_
#define STILLFIELD_REPORT_CHECK_TABLE_H_

#include <span>
#include <string>

#include "report/record.h"

namespace stillfield {

std::string checks_csv(std::span<const ImageRecord> records);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_CHECK_TABLE_H_
