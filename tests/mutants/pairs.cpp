#include "tests/mutants/pairs.hpp"

namespace halflsb::mutants {
namespace {

std::vector<std::string> split(const std::string& text, const std::string& at) {
    std::vector<std::string> parts;
    std::size_t from = 0;
    for (std::size_t next = text.find(at); next != std::string::npos; next = text.find(at, from)) {
        parts.push_back(text.substr(from, next - from));
        from = next + at.size();
    }
    parts.push_back(text.substr(from));
    return parts;
}

class List {
public:
    void add(const char* id, Fault fault, const char* expected, std::vector<const char*> filters) {
        for (const char* filter : filters) all.push_back({id, filter, fault, expected});
    }
    std::vector<Mutant> all;
};

void arithmetic(List& list) {
    list.add("A01", Fault::floor, "floor in place of half-up", {"average", "FIR symmetric", "biquad 0.02"});
    list.add("A02", Fault::toward_zero, "toward-zero in place of half-up", {"average", "FIR symmetric", "biquad 0.02"});
    list.add("S01", Fault::one_late, "each output 1 sample late", {"average", "FIR symmetric", "biquad 0.02"});
    list.add("S07", Fault::no_reset, "a reset leaves the state as it was", {"average", "FIR symmetric", "biquad 0.02"});
    list.add("N04", Fault::bytes_swapped, "at the input: the bytes of each word in the opposite order",
             {"average", "FIR symmetric", "biquad 0.02"});
}

}  // namespace

std::vector<Mutant> every_mutant() {
    List list;
    arithmetic(list);
    return list.all;
}

bool is_expected(const std::string& expected, const std::string& said) {
    const std::vector<std::string> changes = split(said, "; ");
    for (const std::string& alternative : split(expected, " | ")) {
        const std::vector<std::string> words = split(alternative, " + ");
        if (alternative.empty() || words.size() != changes.size()) continue;
        bool is_it = true;
        for (const std::string& each : words) is_it = is_it && said.find(each) != std::string::npos;
        if (is_it) return true;
    }
    return false;
}

}  // namespace halflsb::mutants
