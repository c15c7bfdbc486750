namespace Pipeline.Tests;
public class SmokeTests { [Fact] public void A() => Assert.Equal(2, 1 + 1); }
