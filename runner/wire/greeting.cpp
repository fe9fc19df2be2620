#include "runner/wire/greeting.hpp"

#include <algorithm>
#include <cstdio>

namespace halflsb {
namespace {

constexpr int largest_credit_blocks = 64;

std::string hex_of(const message::Bytes& bytes) {
    std::string text;
    for (const std::byte byte : bytes) {
        char pair[4];
        std::snprintf(pair, sizeof pair, "%02x", std::to_integer<unsigned>(byte));
        text += pair;
    }
    return text;
}

std::string known_formats() {
    std::string text;
    for (const SampleFormat& format : sample_formats()) {
        if (!text.empty()) text += ", ";
        text += std::to_string(format.wire_number) + " " + std::string(format.name);
    }
    return text;
}

/// "0x21"
std::string hex_byte(unsigned byte) {
    char text[8];
    std::snprintf(text, sizeof text, "0x%02X", byte & 0xFFU);
    return text;
}

std::string counted(int count, const std::string& noun) {
    return std::to_string(count) + " " + noun + (count == 1 ? "" : "s");
}

}  // namespace

bool is_clean_utf8(std::string_view text) {
    for (std::size_t at = 0; at < text.size();) {
        const auto byte = [&](std::size_t k) { return static_cast<unsigned char>(text[k]); };
        const unsigned char first = byte(at);
        if (first < 0x20 || first == 0x7F) return false;
        if (first < 0x80) {
            ++at;
            continue;
        }
        const std::size_t length = first >= 0xC2 && first <= 0xDF   ? 2
                                   : (first & 0xF0) == 0xE0         ? 3
                                   : first >= 0xF0 && first <= 0xF4 ? 4
                                                                    : 0;
        if (length == 0 || at + length > text.size()) return false;
        for (std::size_t k = 1; k < length; ++k)
            if ((byte(at + k) & 0xC0) != 0x80) return false;
        const unsigned char second = byte(at + 1);
        // Overlong forms, surrogates, beyond U+10FFFF, and the control characters U+0080 to U+009F.
        if ((first == 0xE0 && second < 0xA0) || (first == 0xED && second > 0x9F) || (first == 0xF0 && second < 0x90) ||
            (first == 0xF4 && second > 0x8F) || (first == 0xC2 && second < 0xA0))
            return false;
        at += length;
    }
    return true;
}

Error GreetingReader::refused(std::string problem) const {
    return Error{ErrorKind::bench, place_, "the board's greeting cannot be used: " + std::move(problem),
                 "correct the firmware; docs/wire.md 2.1 says what a greeting holds"};
}

Outcome<void> GreetingReader::add(const message::GreetingPage& page) {
    if (page.page != read_)
        return refused("asked for page " + std::to_string(read_) + ", it sent page " + std::to_string(page.page));
    if (read_ == 0) {
        pages_ = page.pages;
    } else if (page.pages != pages_) {
        return refused("page " + std::to_string(read_) + " says that there are " + counted(page.pages, "page") +
                       ", page 0 said " + std::to_string(pages_));
    }
    const Outcome<void> added = read_ == 0          ? add_board(page.rest)
                                : read_ <= filters_ ? add_filter(page.rest)
                                                    : add_setting(page.rest);
    if (added) ++read_;
    return added;
}

Outcome<void> GreetingReader::add_board(message::BytesView rest) {
    // Before anything else: another protocol may have another page.
    if (!rest.empty() && std::to_integer<int>(rest[0]) != message::protocol_version)
        return Error{ErrorKind::bench, place_,
                     "the board speaks version " + std::to_string(std::to_integer<int>(rest[0])) +
                         " of the framed wire, this program version " + std::to_string(message::protocol_version),
                     "build the firmware with the kit that came with this program, or use the program of its kit"};
    const std::optional<message::BoardPage> page = message::decode<message::BoardPage>(rest);
    if (!page) return refused("page 0 has the wrong length (" + counted(static_cast<int>(rest.size()), "byte") + ")");
    if (page->filters == 0) return refused("it offers no filter");
    if (pages_ != 1 + page->filters + page->settings)
        return refused("it says " + counted(pages_, "page") + ", but " + counted(page->filters, "filter") + " and " +
                       counted(page->settings, "setting") + " need " +
                       std::to_string(1 + page->filters + page->settings));
    if (page->credit_blocks < 1 || page->credit_blocks > largest_credit_blocks)
        return refused("it grants a credit of " + counted(page->credit_blocks, "block") + "; 1 to " +
                       std::to_string(largest_credit_blocks) + " are possible");
    if (page->max_block_samples == 0) return refused("its largest block has 0 samples");
    if (!is_clean_utf8(page->serial)) return refused("the serial number is not UTF-8 text");
    greeting_.protocol = page->protocol;
    greeting_.build_id = hex_of(page->build_id);
    greeting_.serial = page->serial;
    greeting_.max_block_samples = page->max_block_samples;
    greeting_.credit_blocks = page->credit_blocks;
    greeting_.tick_hz = page->tick_hz;
    greeting_.tick_bits = page->tick_bits;
    filters_ = page->filters;
    return {};
}

Outcome<SampleFormat> GreetingReader::format(std::uint8_t number, const std::string& where) const {
    if (const std::optional<SampleFormat> known = sample_format_of_wire_code(number)) return *known;
    constexpr unsigned name_bits = 0x1F, layout_bits = 0xE0;
    const auto named = std::find_if(sample_formats().begin(), sample_formats().end(), [&](const SampleFormat& format) {
        return format.wire_number == (number & name_bits);
    });
    if (named == sample_formats().end())
        return refused(where + " format " + std::to_string(number & name_bits) + " is unknown; known are " +
                       known_formats());
    return refused(where + " format " + hex_byte(number) + ": " + std::string(named->name) + " has no layout " +
                   hex_byte(number & layout_bits));
}

Outcome<void> GreetingReader::check_name(const std::string& name, const std::string& where) const {
    if (name.empty()) return refused(where + " has no name");
    if (!is_clean_utf8(name)) return refused("the name of " + where + " is not UTF-8 text");
    return {};
}

Outcome<void> GreetingReader::add_filter(message::BytesView rest) {
    const std::string number = "filter " + std::to_string(greeting_.filters.size());
    const std::optional<message::FilterPage> page = message::decode<message::FilterPage>(rest);
    if (!page) return refused("the page of " + number + " has the wrong length");
    if (const Outcome<void> named = check_name(page->name, number); !named) return named.error();
    const std::string where = number + " (\"" + page->name + "\")";
    for (const BoardFilter& other : greeting_.filters)
        if (other.name == page->name) return refused("two filters are named \"" + page->name + "\"");
    if (page->injection > static_cast<std::uint8_t>(Injection::converter))
        return refused(where + ": injection " + std::to_string(page->injection) + " is unknown");
    const Outcome<SampleFormat> input = format(page->input, where + ": input");
    if (!input) return input.error();
    const Outcome<SampleFormat> output = format(page->output, where + ": output");
    if (!output) return output.error();
    if (page->channels_in == 0 || page->channels_out == 0)
        return refused(where + ": a filter has at least one channel");
    if (page->up == 0 || page->down == 0)
        return refused(where + ": it returns " + std::to_string(page->up) + " samples for " +
                       std::to_string(page->down));
    BoardFilter filter;
    filter.name = page->name;
    filter.injection = static_cast<Injection>(page->injection);
    filter.input = *input;
    filter.output = *output;
    filter.channels_in = page->channels_in;
    filter.channels_out = page->channels_out;
    filter.nodes = page->nodes;
    filter.tables = page->tables;
    filter.up = page->up;
    filter.down = page->down;
    greeting_.filters.push_back(std::move(filter));
    return {};
}

Outcome<void> GreetingReader::add_setting(message::BytesView rest) {
    const std::string number = "setting " + std::to_string(greeting_.settings.size());
    const std::optional<message::SettingPage> page = message::decode<message::SettingPage>(rest);
    if (!page) return refused("the page of " + number + " has the wrong length");
    if (const Outcome<void> named = check_name(page->name, number); !named) return named.error();
    if (page->minimum > page->maximum || page->value < page->minimum || page->value > page->maximum)
        return refused(number + " (\"" + page->name + "\"): value " + std::to_string(page->value) + " is not within " +
                       std::to_string(page->minimum) + " to " + std::to_string(page->maximum));
    greeting_.settings.push_back(BoardSetting{page->name, page->minimum, page->maximum, page->value});
    return {};
}

}  // namespace halflsb
