#include "runner/record/strict_json.hpp"

#include <cmath>
#include <set>
#include <vector>

#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr std::size_t longest_shown = 60;

/// What ends the parser at once.
struct Refused {
    std::string problem;
};

class Watch {
public:
    bool operator()(Json::parse_event_t event, const Json& parsed) {
        using Event = Json::parse_event_t;
        if (event == Event::object_start || event == Event::array_start) {
            keys_.emplace_back();
            if (keys_.size() > static_cast<std::size_t>(deepest_json))
                throw Refused{"its values are nested more than " + std::to_string(deepest_json) + " deep"};
        } else if (event == Event::object_end || event == Event::array_end) {
            keys_.pop_back();
        } else if (event == Event::key) {
            const auto& key = parsed.get_ref<const std::string&>();
            if (!keys_.back().insert(key).second) throw Refused{"the key '" + printable(key) + "' is there twice"};
        }
        return true;
    }

private:
    std::vector<std::set<std::string>> keys_;
};

std::string shown(const Json& value) {
    if (value.is_object()) return "an object";
    if (value.is_array()) return "an array";
    std::string text = printable(value.dump(-1, ' ', false, Json::error_handler_t::replace));
    if (columns_of(text) > longest_shown) text = std::string(first_columns(text, longest_shown)) + "...";
    return text;
}

}  // namespace

Outcome<Json> parse_json_strictly(const std::string& text, const std::string& place) {
    const auto refused = [&](const std::string& problem) {
        return Error{ErrorKind::input, place, problem, "is it a run.json that halflsb wrote, and whole?"};
    };
    try {
        Watch watch;
        return Json::parse(text, [&](int, Json::parse_event_t event, Json& parsed) { return watch(event, parsed); });
    } catch (const Refused& found) {
        return refused(found.problem);
    } catch (const Json::parse_error& error) {
        return refused("it is no JSON: byte " + std::to_string(error.byte) + " is not what may stand there");
    } catch (const Json::exception&) {
        return refused("it is no JSON that can be kept: a number is too large");
    }
}

void JsonField::refuse(const std::string& what) const {
    if (problem_->empty()) *problem_ = (place_.empty() ? "the document" : place_) + " " + what;
}

JsonField JsonField::at_or_null(const char* key) const {
    static const Json null;
    if (value_ != nullptr && value_->is_object() && !value_->contains(key))
        return {&null, place_.empty() ? std::string(key) : place_ + "." + key, *problem_};
    return at(key);
}

JsonField JsonField::at(const char* key) const {
    const std::string place = place_.empty() ? key : place_ + "." + key;
    if (value_ == nullptr) return {nullptr, place, *problem_};
    if (!value_->is_object()) {
        refuse("is " + shown(*value_) + ", not an object");
        return {nullptr, place, *problem_};
    }
    const auto found = value_->find(key);
    if (found == value_->end()) {
        JsonField missing{nullptr, place, *problem_};
        missing.refuse("is missing");
        return missing;
    }
    return {&*found, place, *problem_};
}

std::string JsonField::text() const {
    if (value_ == nullptr) return "";
    if (value_->is_string()) return value_->get<std::string>();
    refuse("is " + shown(*value_) + ", not a text");
    return "";
}

std::string JsonField::sha256_or_empty() const {
    const std::string digits = text_or_empty();
    if (!digits.empty() && (digits.size() != 64 || digits.find_first_not_of("0123456789abcdef") != std::string::npos))
        refuse("is " + shown(*value_) + ", not a SHA-256 of 64 hexadecimal digits");
    return digits;
}

std::int64_t JsonField::whole(std::int64_t lowest, std::int64_t highest) const {
    if (value_ == nullptr) return lowest;
    const bool small = value_->is_number_unsigned()
                           ? value_->get<std::uint64_t>() <= static_cast<std::uint64_t>(INT64_MAX)
                           : value_->is_number_integer();
    if (small) {
        const auto number = value_->get<std::int64_t>();
        if (number >= lowest && number <= highest) return number;
    }
    refuse("is " + shown(*value_) + ", not a whole number from " + std::to_string(lowest) + " to " +
           std::to_string(highest));
    return lowest;
}

std::uint64_t JsonField::whole_unsigned() const {
    if (value_ == nullptr) return 0;
    if (value_->is_number_unsigned()) return value_->get<std::uint64_t>();
    refuse("is " + shown(*value_) + ", not a whole number from 0 on");
    return 0;
}

double JsonField::number() const {
    if (value_ == nullptr) return 0.0;
    if (value_->is_number() && std::isfinite(value_->get<double>())) return value_->get<double>();
    refuse("is " + shown(*value_) + ", not a number");
    return 0.0;
}

std::optional<double> JsonField::number_or_none() const {
    return is_null() ? std::nullopt : std::optional<double>(number());
}

bool JsonField::flag() const {
    if (value_ == nullptr) return false;
    if (value_->is_boolean()) return value_->get<bool>();
    refuse("is " + shown(*value_) + ", not true or false");
    return false;
}

void JsonField::each(const std::function<void(const JsonField&)>& take) const {
    if (value_ == nullptr) return;
    if (!value_->is_array()) return refuse("is " + shown(*value_) + ", not an array");
    std::size_t place = 0;
    for (const Json& element : *value_)
        take(JsonField{&element, place_ + "[" + std::to_string(place++) + "]", *problem_});
}

void JsonField::each_member(const std::function<void(const std::string&, const JsonField&)>& take) const {
    if (value_ == nullptr) return;
    if (!value_->is_object()) return refuse("is " + shown(*value_) + ", not an object");
    for (const auto& [key, value] : value_->items())
        take(key, JsonField{&value, place_ + "." + printable(key), *problem_});
}

}  // namespace halflsb
