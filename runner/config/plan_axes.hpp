// The keys of [case.each] and the values that each of them goes through.
#pragma once

#include <map>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "runner/config/problems.hpp"
#include "runner/config/toml_tree.hpp"

namespace halflsb {

inline constexpr std::string_view each_word = "each";
inline constexpr std::string_view each_help =
    "One case for each combination of the values listed under its keys: \"stimulus.level_ratio\" = [0.1, 0.5]. A "
    "value may be a table with a name that sets several keys.";

/// What one value puts into the case: the value stands at `path`, "stimulus.level_ratio" for example.
struct EachSetting {
    std::string path;
    Place key_place;
    const TomlValue* value;
};

struct EachChoice {
    std::string label;  ///< in the name of the case
    Place place;
    std::vector<EachSetting> settings;
};

/// One key; its alternatives.
struct EachAxis {
    std::string key;
    Place key_place;
    std::vector<EachChoice> choices;
    std::map<std::string, Place> labels;  ///< of the choices, each once
};

struct EachAxes {
    std::vector<EachAxis> axes;  ///< in the order of the file
    bool is_clean = true;        ///< false after a report
};

/// Of the table of a case and its [case.each], which must outlive the answer. What is wrong is reported to `problems`.
EachAxes read_axes(const TomlValue& case_table, const TomlValue& each, Problems& problems);

/// "stimulus" and "level_ratio" of "stimulus.level_ratio"; the second is empty for a key of the case itself.
std::pair<std::string, std::string> split_path(const std::string& path);
/// "level_ratio" of it.
std::string last_part(const std::string& path);

}  // namespace halflsb
