// Tables of a run, made from the records of its images.
//
// measurements.csv   one row a measurement, class and image (docs/outputs.md)
// summary.csv        one row a measurement and class over all fields, and over those of each group
// if
//                    there are several (measure/folder_statistics.h, report/field_groups.h)
// Order              images as given; measurements as in the records; all fields first, then the
//                    groups in the order they are first met
#ifndef STILLFIELD_REPORT_TABLES_H_
#define STILLFIELD_REPORT_TABLES_H_

#include <span>
#include <string>

#include "report/record.h"

namespace stillfield {

std::string measurements_csv(std::span<const ImageRecord> records);

// `groups`: one for each record; none at all is one group.
std::string summary_csv(std::span<const ImageRecord> records,
                        std::span<const std::string> groups = {});

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_TABLES_H_
