"""``python -m tests.benchmarks`` prints every benchmark."""

from tests.benchmarks import browser_speed, layouts, model_speed, particles

if __name__ == "__main__":
    model_speed.main()
    particles.main()
    layouts.main()
    browser_speed.main()
