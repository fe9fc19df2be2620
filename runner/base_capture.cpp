#include "runner/base_capture.hpp"

#include <algorithm>
#include <memory>

#include "runner/record/capture_file.hpp"

namespace halflsb {

const CaseResult* result_named(const std::vector<CaseResult>& results, std::string_view name) {
    const auto found =
        std::find_if(results.begin(), results.end(), [&](const CaseResult& result) { return result.name == name; });
    return found == results.end() ? nullptr : &*found;
}

Outcome<BaseResponse> base_response(const Case& companion, const CaseResult* base, const std::string& path,
                                    const std::string& shown, const Signal& signal, int granted_block_samples,
                                    const Files& files) {
    BaseResponse response;
    const std::string name = "its base, \"" + companion.companion->base + "\", ";
    if (base == nullptr) {
        response.missing = name + "was not captured";
    } else if (base->verdict == CaseVerdict::invalid || base->capture_file.empty()) {
        response.missing = name + "has no whole capture" + (base->invalid ? ": " + base->invalid->problem : "");
    }
    if (!response.missing.empty()) return response;
    auto opened = CaptureFile::open(files, path, shown, signal.output, signal.channels);
    if (!opened) return opened.error();
    const auto capture = std::make_shared<CaptureFile>(std::move(*opened));
    response.samples = capture->samples();
    response.block_samples = granted_block_samples;
    response.read = [capture](std::int64_t first, std::span<Code> codes) { return capture->read(first, codes); };
    return response;
}

}  // namespace halflsb
