// JSON that came from elsewhere, read without trust: repeated keys, deep nesting and wrong types are errors with the
// place in the document, never a crash. Inside runner/record only.
#pragma once

#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <string_view>

#include "runner/record/json_parts.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// Objects and arrays inside each other; our own documents have ten.
inline constexpr int deepest_json = 64;

/// `place` is the file's name for errors, which are of kind input.
Outcome<Json> parse_json_strictly(const std::string& text, const std::string& place);

/// A value with its place in the document ("cases[3].capture.file"). What is not as asked is noted in `problem`, once,
/// the first; from then on every question has a harmless answer, so that a reader can go straight through.
class JsonField {
public:
    JsonField(const Json& value, std::string& problem) : JsonField(&value, "", problem) {}

    /// Of an object; a key that is not there is a problem.
    JsonField at(const char* key) const;
    /// Of an object; null where the key is not there.
    JsonField at_or_null(const char* key) const;
    bool is_null() const { return value_ == nullptr || value_->is_null(); }
    std::string text() const;
    /// "" for null.
    std::string text_or_empty() const { return is_null() && value_ != nullptr ? std::string() : text(); }
    /// 64 hexadecimal digits in lower case, or "" for null.
    std::string sha256_or_empty() const;
    std::int64_t whole(std::int64_t lowest, std::int64_t highest) const;
    std::uint64_t whole_unsigned() const;
    /// Finite.
    double number() const;
    std::optional<double> number_or_none() const;
    bool flag() const;
    /// Each element in turn.
    void each(const std::function<void(const JsonField&)>& take) const;
    /// Each member of an object in turn.
    void each_member(const std::function<void(const std::string& key, const JsonField&)>& take) const;
    void refuse(const std::string& what) const;

private:
    JsonField(const Json* value, std::string place, std::string& problem)
        : value_(value), place_(std::move(place)), problem_(&problem) {}

    const Json* value_;  ///< nullptr: something is wrong above it
    std::string place_;
    std::string* problem_;
};

}  // namespace halflsb
