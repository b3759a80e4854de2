// Model checks and the verdict on them as JSON. Private to this room.
#ifndef STILLFIELD_REPORT_CHECK_ARCHIVE_H_
#define STILLFIELD_REPORT_CHECK_ARCHIVE_H_

#include "diagnose/assessment.h"
#include "diagnose/model_check.h"
#include "report/json_archive.h"

namespace stillfield {

template <class Archive>
void describe(Archive& archive, ModelCheck& check) {
  archive("check", check.name);
  archive("class", check.label);
  archive("value", check.value);
  archive("expected", check.expected);
  archive("limit", check.limit);
  archive("p_value", check.p_value);
  archive("failed", check.failed);
  archive("grave", check.grave);
  archive("sentence", check.sentence);
}

template <class Archive>
void describe(Archive& archive, Assessment& assessment) {
  archive("verdict", assessment.word);
  archive("check_failed", assessment.check_failed);
  archive("reasons", assessment.reasons);
}

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_CHECK_ARCHIVE_H_
