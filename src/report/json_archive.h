// Structures to JSON and back by one description of their fields:
//
//   template <class Archive> void describe(Archive& archive, Thing& thing) {
//     archive("name", thing.name);
//   }
//
// Numbers that are not finite become null, and null becomes NaN. Private to this room.
#ifndef STILLFIELD_REPORT_JSON_ARCHIVE_H_
#define STILLFIELD_REPORT_JSON_ARCHIVE_H_

#include <cmath>
#include <limits>
#include <nlohmann/json.hpp>
#include <string>
#include <type_traits>
#include <vector>

#include "report/named_value.h"

namespace stillfield {

using Json = nlohmann::ordered_json;

template <class T>
inline constexpr bool kIsPlain = std::is_arithmetic_v<T> || std::is_same_v<T, std::string>;

class JsonWriter {
 public:
  template <class T>
  void operator()(const char* key, T& value) {
    json_[key] = convert(value);
  }
  // A text that every record holds; reading ignores it.
  void constant(const char* key, Json value) { json_[key] = std::move(value); }

  Json take() { return std::move(json_); }

 private:
  template <class T>
  static Json convert(T& value) {
    if constexpr (std::is_floating_point_v<T>) {
      return std::isfinite(value) ? Json(value) : Json(nullptr);
    } else if constexpr (kIsPlain<T>) {
      return value;
    } else {
      JsonWriter inner;
      describe(inner, value);
      return inner.take();
    }
  }
  template <class T>
  static Json convert(std::vector<T>& list) {
    Json array = Json::array();
    for (T& item : list) array.push_back(convert(item));
    return array;
  }
  static Json convert(std::vector<NamedValue>& list) {
    Json object = Json::object();
    for (NamedValue& item : list) {
      object[item.name] = std::visit([](auto& value) { return convert(value); }, item.value);
    }
    return object;
  }

  Json json_ = Json::object();
};

// Throws nlohmann's exceptions for missing keys and wrong types.
class JsonReader {
 public:
  explicit JsonReader(const Json& json) : json_(&json) {}

  template <class T>
  void operator()(const char* key, T& value) {
    convert(json_->at(key), value);
  }
  void constant(const char* /*key*/, const Json& /*value*/) {}

 private:
  template <class T>
  static void convert(const Json& json, T& value) {
    if constexpr (std::is_floating_point_v<T>) {
      value = json.is_null() ? std::numeric_limits<T>::quiet_NaN() : json.get<T>();
    } else if constexpr (kIsPlain<T>) {
      json.get_to(value);
    } else {
      JsonReader inner(json);
      describe(inner, value);
    }
  }
  template <class T>
  static void convert(const Json& json, std::vector<T>& list) {
    for (const Json& item : json) convert(item, list.emplace_back());
  }
  static void convert(const Json& json, std::vector<NamedValue>& list) {
    for (const auto& [name, value] : json.items()) {
      list.push_back({name, {}});
      if (value.is_boolean()) {
        list.back().value = value.get<bool>();
      } else if (value.is_number_float() || value.is_null()) {
        double number = 0;
        convert(value, number);
        list.back().value = number;
      } else if (value.is_number_unsigned()) {
        list.back().value = value.get<std::uint64_t>();
      } else {
        list.back().value = value.get<std::string>();
      }
    }
  }

  const Json* json_;
};

template <class T>
Json to_json(T value) {
  JsonWriter writer;
  describe(writer, value);
  return writer.take();
}

// Two spaces a level, and a final line break.
inline std::string json_text(const Json& json) {
  return json.dump(2, ' ', false, Json::error_handler_t::replace) + "\n";
}

}  // namespace stillfield

#endif  // STILLFIELD_REPORT_JSON_ARCHIVE_H_
