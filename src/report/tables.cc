#include "report/tables.h"

#include <algorithm>
#include <vector>

#include "measure/folder_statistics.h"
#include "report/csv.h"
#include "report/field_groups.h"

namespace stillfield {
namespace {

constexpr double kUsualAccuracy = 10;  // percent, the customary aim of ASTM E562

using Records = std::vector<const ImageRecord*>;

// Measurements of the same quantity together, in the order they are first met.
std::vector<std::vector<Measurement>> alike_together(const Records& records) {
  std::vector<std::vector<Measurement>> groups;
  for (const ImageRecord* record : records) {
    std::size_t likely = 0;  // records list their measurements in the same order
    for (const Measurement& m : record->measurements) {
      const auto alike = [&m](const std::vector<Measurement>& group) {
        const Measurement& g = group.front();
        return g.name == m.name && g.label == m.label && g.unit == m.unit;
      };
      std::size_t at = likely < groups.size() && alike(groups[likely]) ? likely : 0;
      while (at < groups.size() && !alike(groups[at])) ++at;
      if (at == groups.size()) groups.emplace_back();
      groups[at].push_back(m);
      likely = at + 1;
    }
  }
  return groups;
}

struct FieldGroup {
  std::string name;
  Records records;
};

// All fields, then each group, unless there is one alone.
std::vector<FieldGroup> blocks_of(std::span<const ImageRecord> records,
                                  std::span<const std::string> groups) {
  std::vector<FieldGroup> blocks = {{kAllFields, {}}};
  for (const ImageRecord& record : records) blocks.front().records.push_back(&record);
  if (groups.empty()) return blocks;
  for (std::size_t i = 0; i < records.size(); ++i) {
    const auto named = [&](const FieldGroup& block) { return block.name == groups[i]; };
    auto at = std::find_if(blocks.begin() + 1, blocks.end(), named);
    if (at == blocks.end()) at = blocks.insert(at, {groups[i], {}});
    at->records.push_back(&records[i]);
  }
  if (blocks.size() == 2) blocks.pop_back();
  return blocks;
}

void add_block(const FieldGroup& block, CsvTable& table) {
  for (const std::vector<Measurement>& fields : alike_together(block.records)) {
    const FolderStatistics f = folder_statistics(fields);
    table.start_row();
    table.add(block.name);
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
}

}  // namespace

std::string measurements_csv(std::span<const ImageRecord> records) {
  CsvTable table(
      "image,page,class,measurement,unit,estimate,sd,lower90,upper90,lower95,upper95,mcse,rhat,ess,"
      "plain_estimate,defined_share");
  for (const ImageRecord& record : records) {
    for (const Measurement& m : record.measurements) {
      table.start_row();
      table.add(record.input.path);
      table.add(std::int64_t{record.input.page});
      table.add(std::int64_t{m.label});
      table.add(m.name);
      table.add(m.unit);
      for (const double value : {m.estimate, m.sd, m.lower90, m.upper90, m.lower95, m.upper95,
                                 m.mcse, m.rhat, m.ess, m.plain_estimate, m.defined_share}) {
        table.add(value);
      }
    }
  }
  return table.text();
}

std::string summary_csv(std::span<const ImageRecord> records, std::span<const std::string> groups) {
  CsvTable table(
      "group,class,measurement,unit,n,left_out,mean,s,ci95,lower95,upper95,"
      "relative_accuracy_percent,within_field_sd,basis,further_fields_for_10_percent");
  for (const FieldGroup& block : blocks_of(records, groups)) add_block(block, table);
  return table.text();
}

}  // namespace stillfield
