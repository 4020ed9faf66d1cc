"""``python -m tests.benchmarks`` prints every benchmark."""

from tests.benchmarks import browser_speed, model_speed

if __name__ == "__main__":
    model_speed.main()
    browser_speed.main()
