#include "rigs/virtual-board/options.hpp"

#include <algorithm>
#include <charconv>
#include <functional>
#include <string_view>

#include "rigs/virtual-board/fault_catalogue.hpp"

namespace halflsb::board {

namespace {

template <typename Number>
std::string read_number(const std::string& text, Number& number, std::uint64_t least, std::uint64_t most) {
    std::uint64_t value = 0;
    const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
    if (error != std::errc{} || end != text.data() + text.size() || value < least || value > most) {
        return "takes a whole number from " + std::to_string(least) + " to " + std::to_string(most) + ", not \"" +
               text + "\"";
    }
    number = static_cast<Number>(value);
    return "";
}

std::string read_build_id(const std::string& text, Options& options) {
    std::vector<std::uint8_t> bytes(text.size() / 2);
    bool good = text.size() % 2 == 0 && bytes.size() <= 32;
    for (std::size_t i = 0; good && i < bytes.size(); ++i) {
        const auto [end, error] = std::from_chars(text.data() + 2 * i, text.data() + 2 * i + 2, bytes[i], 16);
        good = error == std::errc{} && end == text.data() + 2 * i + 2;
    }
    if (!good) return "takes up to 64 hexadecimal digits, two a byte, not \"" + text + "\"";
    options.build_id = std::move(bytes);
    return "";
}

struct Option {
    std::string_view name, argument, help;
    std::function<std::string(const std::string& value, Options& options)> read;
};

template <typename Member>
auto into(Member member) {
    return [member](const std::string& value, Options& options) {
        options.*member = value;
        return std::string();
    };
}

auto flag(bool Options::*member) {
    return [member](const std::string&, Options& options) {
        options.*member = true;
        return std::string();
    };
}

const std::vector<Option>& table() {
    static const std::vector<Option> options = {
        {"--link", "PATH", "make a symbolic link to the device, remove it at the end", into(&Options::link)},
        {"--filter-set", "NAMES", "all, cw-7, decisions, rates, or names with commas between; default all",
         into(&Options::filter_set)},
        {"--fault", "NAME[=ARG]", "a fault of --list-faults; may be repeated",
         [](const std::string& value, Options& o) {
             o.faults.push_back(value);
             return std::string();
         }},
        {"--baud", "N", "pace both directions to N / 10 bytes a second; default: unpaced",
         [](const std::string& value, Options& o) { return read_number(value, o.baud, 300, 100'000'000); }},
        {"--block", "N", "largest block of samples; default 1024",
         [](const std::string& value, Options& o) { return read_number(value, o.block_samples, 1, 1024); }},
        {"--credit", "N", "blocks in flight; default 8, and more for smaller blocks",
         [](const std::string& value, Options& o) { return read_number(value, o.credit_blocks, 1, 8); }},
        {"--serial", "TEXT", "serial number in the greeting, to 24 bytes; default VB-0001",
         [](const std::string& value, Options& o) {
             o.serial = value;
             return value.size() <= 24 ? std::string() : std::string("takes up to 24 bytes, not \"" + value + "\"");
         }},
        {"--build-id", "HEX", "build-id in the greeting, \"\" for none; default: this program's own", read_build_id},
        {"--stats", "FILE", "write counters as JSON there, at the end and on SIGUSR1", into(&Options::stats_file)},
        {"--ready-fd", "N", "write the device's name to that descriptor too, once served",
         [](const std::string& value, Options& o) { return read_number(value, o.ready_descriptor, 0, 1'000'000); }},
        {"--parent-dies", "", "end when the process that started this one ends", flag(&Options::dies_with_parent)},
        {"--list-filters", "", "print the filters, their formats and how they round", flag(&Options::list_filters)},
        {"--list-faults", "", "print the faults and the filters that can show each", flag(&Options::list_faults)},
        {"--help", "", "print this", flag(&Options::help)},
    };
    return options;
}

}  // namespace

std::string read_options(const std::vector<std::string>& arguments, Options& options) {
    for (std::size_t i = 0; i < arguments.size(); ++i) {
        const std::size_t equals = arguments[i].rfind("--", 0) == 0 ? arguments[i].find('=') : std::string::npos;
        const std::string name = arguments[i] == "-h" ? "--help" : arguments[i].substr(0, equals);
        const auto option =
            std::find_if(table().begin(), table().end(), [&](const Option& o) { return o.name == name; });
        if (option == table().end()) {
            std::vector<std::string_view> known;
            for (const Option& other : table()) known.push_back(other.name);
            return "unknown option \"" + name + "\"; the nearest is \"" + std::string(nearest(name, known)) + "\"";
        }
        std::string value;
        if (!option->argument.empty()) {
            if (equals == std::string::npos && i + 1 == arguments.size()) {
                return name + " needs " + std::string(option->argument);
            }
            value = equals == std::string::npos ? arguments[++i] : arguments[i].substr(equals + 1);
        } else if (equals != std::string::npos) {
            return name + " takes no value";
        }
        if (const std::string problem = option->read(value, options); !problem.empty()) return name + " " + problem;
    }
    return "";
}

std::string usage() {
    std::string text =
        "usage: virtual-board [options]\n\n"
        "A board on a pseudo-terminal: the kit of rigs/kit and the filters of rigs/filters. The first line on stdout "
        "is\n"
        "the device's name. Ends on SIGTERM, SIGINT or SIGHUP.\n\n";
    for (const Option& option : table()) {
        std::string left = "  " + std::string(option.name) + " " + std::string(option.argument);
        left.resize(std::max<std::size_t>(left.size() + 1, 26), ' ');
        text += left + std::string(option.help) + "\n";
    }
    return text;
}

}  // namespace halflsb::board
