using System.Reflection;
using System.Runtime.CompilerServices;
using System.Text;

namespace TmLab.RulesTests;

/// <summary>Writes an assembly's public surface as sorted text, one member a line; what the compiler adds to records is left out.</summary>
internal static class PublicApiListing
{
    private const BindingFlags Declared =
        BindingFlags.Public | BindingFlags.NonPublic | BindingFlags.Instance | BindingFlags.Static | BindingFlags.DeclaredOnly;

    private static readonly NullabilityInfoContext Nullability = new();

    public static string Of(string assembly)
    {
        var text = new StringBuilder();
        foreach (Type type in Assembly.Load(assembly).GetExportedTypes().OrderBy(t => t.FullName, StringComparer.Ordinal))
        {
            text.Append(Describe(type)).Append('\n');
            foreach (string member in Members(type).Distinct().Order(StringComparer.Ordinal))
            {
                text.Append("  ").Append(member).Append('\n');
            }
        }

        return text.ToString();
    }

    private static string Describe(Type type)
    {
        string kind = type switch
        {
            { IsEnum: true } => "enum",
            { IsInterface: true } => "interface",
            { IsValueType: true } => PublicTypes.IsRecord(type) ? "record struct" : "struct",
            _ when typeof(Delegate).IsAssignableFrom(type) => "delegate",
            _ => (type.IsAbstract && type.IsSealed ? "static " : type.IsAbstract ? "abstract " : type.IsSealed ? "sealed " : "")
                + (PublicTypes.IsRecord(type) ? "record" : "class"),
        };
        IEnumerable<Type> implied = type.GetInterfaces().SelectMany(i => i.GetInterfaces()).Concat(type.BaseType?.GetInterfaces() ?? []);
        Type[] inherited = [.. type.GetInterfaces().Except(implied)];
        IEnumerable<string> bases = (type.BaseType is { } b && b != typeof(object) && b != typeof(ValueType) && b != typeof(Enum) ? [b] : Type.EmptyTypes)
            .Concat(type.IsEnum ? [] : inherited)
            .Select(TypeName)
            .Order(StringComparer.Ordinal);
        string suffix = string.Join(", ", bases);
        return $"{kind} {type.Namespace}.{TypeName(type)}{(suffix.Length > 0 ? $" : {suffix}" : "")}";
    }

    private static IEnumerable<string> Members(Type type)
    {
        if (type.IsEnum)
        {
            return Enum.GetNames(type).Select(n => $"{n} = {Convert.ToInt64(Enum.Parse(type, n), null)}");
        }

        IEnumerable<string> constructors = type.GetConstructors(Declared).Where(IsVisible).Select(c => $"new({Parameters(c)})");
        IEnumerable<string> methods = type.GetMethods(Declared)
            .Where(m => IsVisible(m) && !IsAccessor(m) && !m.IsDefined(typeof(CompilerGeneratedAttribute)))
            .Select(m => $"{Static(m.IsStatic)}{TypeName(m.ReturnType)} {m.Name}{Generics(m)}({Parameters(m)})");
        IEnumerable<string> properties = type.GetProperties(Declared).Where(p => p.GetAccessors(nonPublic: true).Any(IsVisible)).Select(Describe);
        IEnumerable<string> fields = type.GetFields(Declared).Where(f => f.IsPublic || f.IsFamily).Select(Describe);
        return constructors.Concat(methods).Concat(properties).Concat(fields);
    }

    private static string Describe(PropertyInfo p)
    {
        string set = p.SetMethod is not { } s || !IsVisible(s) ? "" : PublicTypes.IsSettable(p) ? " set;" : " init;";
        bool isStatic = p.GetAccessors(nonPublic: true)[0].IsStatic;
        string index = string.Join(", ", p.GetIndexParameters().Select(i => TypeName(i.ParameterType)));
        return $"{Static(isStatic)}{TypeName(p.PropertyType)}{Mark(Nullability.Create(p), p.PropertyType)} {p.Name}{(index.Length > 0 ? $"[{index}]" : "")} {{ get;{set} }}";
    }

    private static string Describe(FieldInfo f) =>
        f.IsLiteral ? $"const {TypeName(f.FieldType)} {f.Name} = {FormattableString.Invariant($"{f.GetRawConstantValue()}")}"
            : $"{Static(f.IsStatic)}{(f.IsInitOnly ? "readonly " : "")}{TypeName(f.FieldType)} {f.Name}";

    private static string Parameters(MethodBase method) => string.Join(", ", method.GetParameters().Select(p =>
        $"{TypeName(p.ParameterType)}{Mark(Nullability.Create(p), p.ParameterType)} {p.Name}{(p.HasDefaultValue ? $" = {Default(p)}" : "")}"));

    private static string Default(ParameterInfo parameter) => FormattableString.Invariant($"{parameter.RawDefaultValue ?? "default"}");

    /// <summary>A question mark for a reference that may be null; value types carry theirs in the type.</summary>
    private static string Mark(NullabilityInfo info, Type type) =>
        !type.IsValueType && (info.WriteState == NullabilityState.Nullable || info.ReadState == NullabilityState.Nullable) ? "?" : "";

    private static string Static(bool isStatic) => isStatic ? "static " : "";

    private static string Generics(MethodInfo method) =>
        method.IsGenericMethod ? $"<{string.Join(", ", method.GetGenericArguments().Select(TypeName))}>" : "";

    private static bool IsVisible(MethodBase m) => m.IsPublic || m.IsFamily || m.IsFamilyOrAssembly;

    private static bool IsAccessor(MethodInfo m) => m.IsSpecialName && !m.Name.StartsWith("op_", StringComparison.Ordinal);

    private static string TypeName(Type type)
    {
        if (type.IsByRef)
        {
            return $"ref {TypeName(type.GetElementType()!)}";
        }

        if (type.IsPointer || type.IsArray)
        {
            return TypeName(type.GetElementType()!) + (type.IsArray ? "[]" : "*");
        }

        if (Nullable.GetUnderlyingType(type) is { } underlying)
        {
            return TypeName(underlying) + "?";
        }

        string outer = type is { IsNested: true, IsGenericParameter: false } ? TypeName(type.DeclaringType!) + "." : "";
        string name = type.Name.Split('`')[0];
        return type.IsGenericType ? $"{outer}{name}<{string.Join(", ", type.GetGenericArguments().Select(TypeName))}>" : outer + name;
    }
}
