#include "report/record.h"

#include <span>

#include "core/error.h"
#include "image/atomic_file.h"
#include "image/digest.h"
#include "image/file_bytes.h"
#include "report/check_archive.h"
#include "report/json_archive.h"
#include "report/restoration_archive.h"
#include "report/versions.h"

namespace stillfield {
namespace {

constexpr char kFormat[] = "stillfield record 2";

Json cautions() {
  return {"Not a medical device, and not for diagnosis or treatment.",
          "No diagnosis, release of a part or decision on safety may rest on these figures alone; "
          "local codes and licensed practice decide.",
          "Intervals hold under the model stated here; they do not cover errors of sampling, "
          "preparation, focus or calibration."};
}

}  // namespace

template <class Archive>
void describe(Archive& archive, InputFacts& input) {
  archive("path", input.path);
  archive("sha256", input.sha256);
  archive("bytes", input.bytes);
  archive("page", input.page);
  archive("pages", input.pages);
  archive("width", input.width);
  archive("height", input.height);
  archive("samples", input.samples);
  archive("channels", input.channels);
  archive("pixel_size_um", input.pixel_size_um);
  archive("pixel_size_from", input.pixel_size_from);
  archive("plane", input.plane);
  archive("notes", input.notes);
}

template <class Archive>
void describe(Archive& archive, GreyFacts& grey) {
  archive("levels", grey.levels);
  archive("distinct", grey.distinct);
  archive("origin", grey.origin);
  archive("step", grey.step);
  archive("observed_pixels", grey.observed);
  archive("missing_pixels", grey.missing);
}

template <class Archive>
void describe(Archive& archive, TraceSummary& summary) {
  archive("mean", summary.mean);
  archive("sd", summary.sd);
  archive("lower90", summary.lower90);
  archive("upper90", summary.upper90);
  archive("lower95", summary.lower95);
  archive("upper95", summary.upper95);
  archive("mcse", summary.mcse);
  archive("rhat", summary.rhat);
  archive("ess_bulk", summary.ess_bulk);
  archive("ess_tail", summary.ess_tail);
}

template <class Archive>
void describe(Archive& archive, NamedSummary& scalar) {
  archive("name", scalar.name);
  describe(archive, scalar.summary);
}

template <class Archive>
void describe(Archive& archive, ClassFacts& facts) {
  archive("class", facts.label);
  archive("alpha", facts.alpha);
  archive("mean", facts.mean);
  archive("sd", facts.sd);
}

template <class Archive>
void describe(Archive& archive, ModelFacts& model) {
  archive("beta", model.beta);
  archive("beta_lower95", model.beta_lower95);
  archive("beta_upper95", model.beta_upper95);
  archive("log_partition_hysteresis", model.log_partition_hysteresis);
  archive("classes", model.classes);
}

template <class Archive>
void describe(Archive& archive, BlurFacts& blur) {
  archive("sd_px", blur.value);
  archive("lower90", blur.lower90);
  archive("upper90", blur.upper90);
  archive("estimated", blur.estimated);
  archive("modelled", blur.modelled);
}

template <class Archive>
void describe(Archive& archive, ShadingFacts& shading) {
  archive("coefficients_a_side", shading.coefficients);
  archive("modelled", shading.modelled);
  archive("first_span", shading.first_span);
  archive("lowest", shading.lowest);
  archive("highest", shading.highest);
  archive("mean_sd", shading.mean_sd);
  archive("largest_sd", shading.largest_sd);
}

template <class Archive>
void describe(Archive& archive, ClassesTried& tried) {
  archive("classes", tried.classes);
  archive("score", tried.score);
  archive("below_best", tried.below_best);
  archive("error", tried.error);
}

template <class Archive>
void describe(Archive& archive, ClassChoiceFacts& choice) {
  archive("used", choice.used);
  archive("best_explained_by", choice.best_explained_by);
  archive("runner_up", choice.runner_up);
  archive("margin", choice.margin);
  archive("tried", choice.tried);
}

template <class Archive>
void describe(Archive& archive, CouplingTried& tried) {
  archive("beta", tried.beta);
  archive("score", tried.score);
}

template <class Archive>
void describe(Archive& archive, ScheduleFacts& schedule) {
  archive("adapting_sweeps", schedule.adapting_sweeps);
  archive("warming_sweeps", schedule.warming_sweeps);
  archive("sampling_sweeps", schedule.sampling_sweeps);
  archive("warm_up_forced", schedule.warm_up_forced);
  archive("stopped_by_limit", schedule.stopped_by_limit);
}

template <class Archive>
void describe(Archive& archive, BootstrapFacts& bootstrap) {
  archive("replicates", bootstrap.replicates);
  archive("corrected_measurements", bootstrap.corrected);
  archive("blur_px", bootstrap.blur);
}

template <class Archive>
void describe(Archive& archive, ProbabilityFacts& probability) {
  archive("mcse", probability.mcse);
  archive("share_rhat_above_1_05", probability.share_rhat_above_1_05);
  archive("uncertain_share", probability.uncertain_share);
}

template <class Archive>
void describe(Archive& archive, VerdictFacts& verdict) {
  archive("converged", verdict.converged);
  archive("sentences", verdict.sentences);
}

template <class Archive>
void describe(Archive& archive, Measurement& m) {
  archive("measurement", m.name);
  archive("class", m.label);
  archive("unit", m.unit);
  archive("estimate", m.estimate);
  archive("sd", m.sd);
  archive("lower90", m.lower90);
  archive("upper90", m.upper90);
  archive("lower95", m.lower95);
  archive("upper95", m.upper95);
  archive("mcse", m.mcse);
  archive("rhat", m.rhat);
  archive("ess", m.ess);
  archive("plain_estimate", m.plain_estimate);
  archive("defined_share", m.defined_share);
}

template <class Archive>
void describe(Archive& archive, OutputFile& output) {
  archive("suffix", output.suffix);
  archive("bytes", output.bytes);
  archive("sha256", output.sha256);
}

template <class Archive>
void describe(Archive& archive, RunFacts& run) {
  archive("cpu_target", run.cpu_target);
  archive("threads", run.threads);
  archive("read_seconds", run.read_seconds);
  archive("sample_seconds", run.sample_seconds);
  archive("write_seconds", run.write_seconds);
}

template <class Archive>
void describe(Archive& archive, ImageRecord& record) {
  archive.constant("format", kFormat);
  archive.constant("program", kProgramName);
  archive("command", record.command);
  archive("version", record.version);
  archive("libraries", record.libraries);
  archive("settings_digest", record.settings_digest);
  archive("input", record.input);
  archive("settings", record.settings);
  archive("image_seed", record.image_seed);
  if (record.command == kDenoise) {
    archive("restoration", record.restoration);
  } else {
    archive("grey_levels", record.grey);
    archive("class_choice", record.class_choice);
    archive("model", record.model);
    archive("blur", record.blur);
    archive("shading", record.shading);
    archive("coupling_tried", record.coupling_tried);
    archive("schedule", record.schedule);
    archive("scalars", record.scalars);
    archive("probability", record.probability);
    archive("bootstrap", record.bootstrap);
  }
  archive("verdict", record.verdict);
  if (record.command != kDenoise) {
    archive("assessment", record.assessment);
    archive("checks", record.checks);
  }
  archive("measurements", record.measurements);
  archive("outputs", record.outputs);
  archive.constant("cautions", cautions());
  archive("run", record.run);
}

std::string settings_digest(const std::vector<NamedValue>& settings,
                            const std::string& input_sha256, int page) {
  JsonWriter writer;
  std::string version = program_version();
  std::vector<NamedValue> list = settings;
  std::string sha256 = input_sha256;
  writer("version", version);
  writer("settings", list);
  writer("input", sha256);
  writer("page", page);
  const std::string text = writer.take().dump();
  return sha256_hex(std::as_bytes(std::span(text)));
}

std::string record_text(const ImageRecord& record) {
  return json_text(to_json(record));
}

ImageRecord parse_record(const std::string& text) {
  try {
    const Json json = Json::parse(text);
    if (json.at("format") != kFormat) throw Error(ErrorKind::kInput, "is a record of another kind");
    ImageRecord record;
    JsonReader reader(json);
    describe(reader, record);
    return record;
  } catch (const Json::exception&) {
    throw Error(ErrorKind::kInput, "is no complete record; analyse its image again");
  }
}

void write_record(const std::filesystem::path& file, const ImageRecord& record) {
  write_text_atomically(file, record_text(record));
}

ImageRecord read_record(const std::filesystem::path& file) {
  const std::vector<std::byte> bytes = read_whole(file);
  try {
    return parse_record({reinterpret_cast<const char*>(bytes.data()), bytes.size()});
  } catch (const Error& error) {
    throw_input(file, error.what());
  }
}

}  // namespace stillfield
