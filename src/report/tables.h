// Tables of a run, made from the records of its images.
//
// measurements.csv   one row a measurement, class and image (docs/outputs.md)
// summary.csv        one row a measurement and class: the folder (measure/folder_statistics.h)
// Order              images as given; measurements as in the records
#ifndef STILLFIELD_REPORT_TABLES_H_
#define STILLFIELD_REPORT_TABLES_H_

#include <span>
#include <string>

#include "report/record.h"

namespace stillfield {

std::string measurements_csv(std::span<const ImageRecord> records);
std::string summary_csv(std::span<const ImageRecord> records);

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_TABLES_H_
