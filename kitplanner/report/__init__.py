"""From a plan and its answers to words and paper content, without Qt."""
