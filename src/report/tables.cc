#include "report/tables.h"

#include "report/field_groups.h"

namespace stillfield {
namespace {

constexpr double kUsualAccuracy = 10;  // percent, the customary aim of ASTM E562

void add_row(const std::string& group, const FolderStatistics& f, CsvTable& table) {
  table.start_row();
  table.add(group);
  table.add(std::int64_t{f.label});
  table.add(f.name);
  table.add(f.unit);
  table.add(f.fields);
  table.add(f.left_out);
  for (const double value :
       {f.mean, f.s, f.ci95, f.lower95, f.upper95, f.relative_accuracy, f.within_field_sd}) {
    table.add(value);
  }
  table.add(f.basis);
  if (const auto further = further_fields(f, kUsualAccuracy)) {
    table.add(*further);
  } else {
    table.add(kUnknown);
  }
}

}  // namespace

CsvTable measurements_table() {
  return CsvTable(
      "image,page,class,measurement,unit,estimate,sd,lower90,upper90,lower95,upper95,mcse,rhat,ess,"
      "plain_estimate,defined_share");
}

void add_measurements(const ImageRecord& record, CsvTable& table) {
  for (const Measurement& m : record.measurements) {
    table.start_row();
    table.add(record.input.path);
    table.add(std::int64_t{record.input.page});
    table.add(std::int64_t{m.label});
    table.add(m.name);
    table.add(m.unit);
    for (const double value : {m.estimate, m.sd, m.lower90, m.upper90, m.lower95, m.upper95, m.mcse,
                               m.rhat, m.ess, m.plain_estimate, m.defined_share}) {
      table.add(value);
    }
  }
}

SummaryTable::SummaryTable() : blocks_{{kAllFields, {}}} {}

void SummaryTable::add(const ImageRecord& record, const std::string& group) {
  const auto [place, is_new] = of_group_.try_emplace(group, blocks_.size());
  if (is_new) blocks_.push_back({group, {}});
  add(record, blocks_.front());
  add(record, blocks_[place->second]);
}

void SummaryTable::add(const ImageRecord& record, Block& block) {
  std::vector<FolderScatter>& quantities = block.quantities;
  std::size_t likely = 0;  // records list their measurements in the same order
  for (const Measurement& m : record.measurements) {
    std::size_t at = likely < quantities.size() && quantities[likely].alike(m) ? likely : 0;
    while (at < quantities.size() && !quantities[at].alike(m)) ++at;
    if (at < quantities.size()) {
      quantities[at].add(m);
    } else {
      quantities.emplace_back(m);
    }
    likely = at + 1;
  }
}

std::string SummaryTable::text() const {
  CsvTable table(
      "group,class,measurement,unit,n,left_out,mean,s,ci95,lower95,upper95,"
      "relative_accuracy_percent,within_field_sd,basis,further_fields_for_10_percent");
  const std::size_t shown = blocks_.size() == 2 ? 1 : blocks_.size();  // one group is all fields
  for (std::size_t b = 0; b < shown; ++b) {
    for (const FolderScatter& quantity : blocks_[b].quantities) {
      add_row(blocks_[b].group, quantity.statistics(), table);
    }
  }
  return table.text();
}

}  // namespace stillfield
