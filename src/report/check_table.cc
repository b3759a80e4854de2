#include "report/check_table.h"

namespace stillfield {

CsvTable checks_table() {
  return CsvTable("image,page,verdict,check,class,value,expected,limit,p_value,state,sentence");
}

void add_checks(const ImageRecord& record, CsvTable& table) {
  for (const ModelCheck& check : record.checks) {
    table.start_row();
    table.add(record.input.path);
    table.add(std::int64_t{record.input.page});
    table.add(record.assessment.word);
    table.add(check.name);
    table.add(std::int64_t{check.label});
    for (const double value : {check.value, check.expected, check.limit, check.p_value}) {
      table.add(value);
    }
    table.add(check.grave ? "grave" : (check.failed ? "failed" : "passed"));
    table.add(check.sentence);
  }
}

}  // namespace stillfield
