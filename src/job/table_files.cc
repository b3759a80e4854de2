#include "job/table_files.h"

#include "image/file_bytes.h"
#include "job/output_folder.h"
#include "report/check_table.h"
#include "report/particle_csv.h"

namespace stillfield {

namespace fs = std::filesystem;

TableFiles::TableFiles(const fs::path& folder, const std::string& command)
    : folder_(folder), measurements_(folder / "measurements.csv", measurements_table()) {
  if (command != kSegment) return;
  checks_.emplace(folder / "checks.csv", checks_table());
  particles_.emplace(folder / "particles.csv");
  particles_->write(particles_header());
}

void TableFiles::add(const ImageRecord& record, const std::string& group, const fs::path& stem) {
  std::vector<std::byte> particles;
  if (particles_) particles = read_whole(with_suffix(stem, kParticlesSuffix));
  summary_.add(record, group);
  add_measurements(record, measurements_.table);
  measurements_.file.write(measurements_.table.take());
  if (checks_) {
    add_checks(record, checks_->table);
    checks_->file.write(checks_->table.take());
  }
  if (particles_) {
    particles_->write(
        particle_rows({reinterpret_cast<const char*>(particles.data()), particles.size()}));
  }
}

void TableFiles::commit() {
  measurements_.file.write(measurements_.table.text());
  measurements_.file.commit_if_changed();
  write_if_changed(folder_ / "summary.csv", summary_.text());
  if (checks_) {
    checks_->file.write(checks_->table.text());
    checks_->file.commit_if_changed();
  }
  if (particles_) particles_->commit_if_changed();
}

RunFile::RunFile(const fs::path& file, const RunHead& head) : file_(file) {
  file_.write(run_head(head));
}

void RunFile::add(const RunImage& image) {
  file_.write(run_image(image, first_));
  first_ = false;
}

void RunFile::commit(const std::vector<NamedValue>& counts) {
  file_.write(run_tail(counts));
  file_.commit_if_changed();
}

void take_verdict(const ImageRecord& record, RunImage& image) {
  image.converged = record.verdict.converged;
  if (record.command != kSegment) return;
  image.verdict = record.assessment.word;
  image.reasons = record.assessment.reasons;
}

}  // namespace stillfield
