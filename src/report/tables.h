// Tables of a run, made from the records of its images one by one; no record is kept.
//
// measurements.csv   one row a measurement, class and image (docs/outputs.md)
// summary.csv        one row a measurement and class over all fields, and over those of each group
//                    if there are several (measure/folder_statistics.h, report/field_groups.h)
// Order              images as given; measurements as in the records; all fields first, then the
//                    groups in the order they are first met
#ifndef STILLFIELD_REPORT_TABLES_H_
#define STILLFIELD_REPORT_TABLES_H_

#include <map>
#include <string>
#include <vector>

#include "measure/folder_statistics.h"
#include "report/csv.h"
#include "report/record.h"

namespace stillfield {

CsvTable measurements_table();
void add_measurements(const ImageRecord& record, CsvTable& table);

class SummaryTable {
 public:
  SummaryTable();
  void add(const ImageRecord& record, const std::string& group);
  std::string text() const;

 private:
  struct Block {
    std::string group;
    std::vector<FolderScatter> quantities;  // in the order they are first met
  };
  static void add(const ImageRecord& record, Block& block);

  std::vector<Block> blocks_;  // all fields first
  std::map<std::string, std::size_t> of_group_;
};

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_TABLES_H_
