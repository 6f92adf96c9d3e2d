#include "options.h"

#include <cmath>
#include <cstdlib>
#include <utility>

#include "kinegate/error.h"

namespace kinegate::trigger {

Options::Options(int argc, char** argv, std::map<std::string, std::string> known)
    : values_(std::move(known)) {
  for (int i = 1; i < argc; i += 2) {
    const std::string name = argv[i];
    const auto flag = name.substr(0, 2) == "--" ? values_.find(name.substr(2)) : values_.end();
    if (flag == values_.end() || i + 1 == argc) {
      std::string all;
      for (const auto& [each, value] : values_)
        all += " --" + each + (value.empty() ? "" : " (" + value + ")");
      throw Error(name + (flag == values_.end() ? " is no flag; there are" : " needs a value;") + all,
                  grpc::StatusCode::INVALID_ARGUMENT);
    }
    flag->second = argv[i + 1];
  }
}

double Options::number(const std::string& name) const {
  const std::string& value = text(name);
  char* end = nullptr;
  const double number = std::strtod(value.c_str(), &end);
  if (value.empty() || *end != '\0' || !std::isfinite(number) || number <= 0) {
    throw Error("--" + name + " " + value + " is no number above 0", grpc::StatusCode::INVALID_ARGUMENT);
  }
  return number;
}

}  // namespace kinegate::trigger
